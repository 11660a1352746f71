"""The words that job files are made of, for the deflate dictionary of handed-over codes; the commonest stand last.

Part of form 1 for ever: whoever reads a code needs this very text. Other words come only with another form; a test
holds its hash.
"""

from __future__ import annotations

DICTIONARY = (
    '"lb/ft³"},"g/L"},"US gal/person/day"},"L/person/day"},"gpd"},"m³/day"},"gpm"},"L/min"},"L/day"},'
    '"m³/h"},"°C"},"°F"},"µS/cm"},"meq/L"},"°fH"},"°e"},"mg/L HCO3"},"mg/L Ca"},"mg/L Mg"},'
    '"mg/L SO4"},"mg/L NO3"},"mg/L Cl"},"mg/L K"},"signoff","visits":[{"date":"20",'
    '"readings":{"raw":[,"softened":[,"blend":[,"note":"","offer":{"years":10,'
    '"terms":{"currency":"€","places":2,"rounding":"half up","tax_rule":"per total",'
    '"tax_rates":{"standard":"19"},"salt":{"price":"","per":"25","unit":"kg"},"potassium_salt":null,'
    '"water":{"price":"","per":"1","unit":"m³"},"service_year":null,"items":[]},'
    '"options":[{"name":"","discount":"0","design":{"name":"","resin":,"kind":"single","salt":"nacl",'
    '"salt_dose":,"salt_each":,"salt_year":,"water_year":,"load":,"blended":false},'
    '"lines":[{"name":"","unit":"each","quantity":"1","price":"","discount":"0","tax":"standard",'
    '"key":""},"softener.iron_rule":"iron-4","softener.kind":"single","twin","softener.salt":"nacl",'
    '"kcl","demand.peak_rule":"nspc","din","demand.use":"us-indoor","de",'
    '"uk"}}"water.calcium":{"value":,"water.magnesium":{"value":,"water.potassium":{"value":,'
    '"water.chloride":{"value":,"water.sulfate":{"value":,"water.nitrate":{"value":,'
    '"water.conductivity":{"value":,"water.temperature":{"value":,"water.sodium":{"value":,'
    '"water.manganese":{"value":0,"unit":"mg/L Mn","source":"report"},"water.alkalinity":{"value":,'
    '"unit":"mmol/L K_S4.3","source":"measured"},"softener.salt_dose":{"value":6,'
    '"softener.shortest":{"value":3,"softener.longest":{"value":14,'
    '"demand.softened_share":{"value":100,"unit":"%","source":"assumed"},'
    '"demand.peak_flow":{"value":,"demand.per_person":{"value":,"demand.daily_volume":{"value":,'
    '"blend.measured":{"value":,"blend.softened":{"value":,"blend.target":{"value":8,"unit":"°dH",'
    '"source":"told"},"demand.bathrooms":{"value":2,"unit":"","source":"told"},'
    '"demand.persons":{"value":4,"unit":"","source":"told"},"softener.resin":{"value":,"unit":"L",'
    '"source":"told"},"water.iron":{"value":0.,"unit":"mg/L Fe","source":"measured",'
    '"kit":"colour comparator"},"water.ph":{"value":7.,"unit":"","source":"measured","typed":""},'
    '"water.hardness":{"value":2,"unit":"mg/L CaCO3","source":"measured","kit":"drop count"},'
    '"unit":"mmol/L","unit":"gpg","unit":"°dH","source":"report"},{"format":"tapwright job",'
    '"version":1,"id":"","name":"","place":"","notes":"","changed":"20","entries":{},"choices":{'
).encode()
