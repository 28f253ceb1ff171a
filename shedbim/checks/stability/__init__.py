"""Stability by computation: the whole building as a frame, each truss and each panel of bracing as pin-jointed bars.

Nothing here knows what a sound building looks like: bars, joints and supports come from the shed, and what can move
without any bar being stretched, bent or twisted is a mechanism, whichever rule it keeps. Sizes of sections play no
part: a mechanism has no stiffness however stout its bars, and no strength or deflection is worked out.
"""
