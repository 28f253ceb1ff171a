"""Published sections: their shapes, their tables of sizes, and the look-up of a designation.

    designation ─parse─▶ name and size ─family─▶ entry of its CSV ─shape─▶ Profile ─▶ Section

``catalogue`` is the way in. A family is one row of ``FAMILIES`` in the module that knows its shape:
``rolled``, ``us_wide_flange``, ``channels``, ``hollow``, ``angles``, and ``by_dimension`` for those without a
table. Every row of ``data/*.csv`` names the standard of its dimensions and how the row was obtained: seen in
a published table, as held by an open package, or a value from memory. Areas, masses and moments are never
read from a table: ``Section`` computes them from the outline with its fillets.
"""
