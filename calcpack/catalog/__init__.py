"""Published tables and the bibliography: every number leaves here in SI, with the row and the source it came from.

``sources``   the bibliography of the whole project
``table``     reading a table file; :class:`~calcpack.catalog.table.CatalogValue`
``pipes``     pipe sizes by standard
``fittings``  loss coefficients of fittings and valves
``materials`` pipe roughness
``motors``    motor ratings, margins and efficiency
``pumps``     acceptance grades, factors for viscous liquids and reciprocating pumps
``criteria``  velocity ranges and suction margins
``water``     properties of liquid water
"""
