"""Which data of a furnace wall deserve a measurement? Per cent of the heat loss per per cent of each. An invented plant."""
import tepor

given = {"gas temperature": 1150.0, "film inside": 80.0, "brick conductivity": 1.30, "brick thickness": 0.230,
         "backing conductivity": 0.25, "backing thickness": 0.110, "contact": 500.0, "film outside": 9.0,
         "hall temperature": 25.0}  # degC, W/(m2 K), W/(m K), m
p = {name: tepor.Parameter(name, value) for name, value in given.items()}
wall = tepor.Body(tepor.layers([("brick", p["brick thickness"], 4), ("backing", p["backing thickness"], 4)]))
wall.material("brick", p["brick conductivity"])
wall.material("backing", p["backing conductivity"])
wall.contact("brick", "backing", p["contact"])
wall.film("inner", p["film inside"], p["gas temperature"])
wall.film("outer", p["film outside"], p["hall temperature"])

loss, shell = tepor.heat_out_through("outer"), tepor.mean_on("outer")
field = wall.steady()
print(f"loss    {field[loss]:8.2f} W/m2")
print(f"casing  {field[shell]:8.2f} degC")
print("parameter                     value     W/m2 per unit    % per %")
for name, value, slope, relative in field.gradient(loss).ranked():
    print(f"{name:22s} {value:12.4g} {slope:17.5g} {relative:10.4f}")
print(field.balance())
print(tepor.CAUTION_TOUCH)
