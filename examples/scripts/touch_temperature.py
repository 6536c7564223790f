"""How thick must the insulation of a hot duct wall be, so that its casing stays at 50 degC? An invented plant."""
import tepor

thickness = tepor.Parameter("insulation thickness", 0.05)  # m
wall = tepor.Body(tepor.layers([("steel", 0.004, 1), ("insulation", thickness, 8), ("casing", 0.001, 1)]))
wall.material("steel", 45.0)
wall.material("insulation", tepor.table([(20, 0.038), (200, 0.062), (400, 0.105)]))  # W/(m K) over degC
wall.material("casing", 200.0)
wall.film("inner", 40.0, 320.0)   # W/(m2 K), degC of the gas
wall.film("outer", 6.0, 30.0)
wall.radiation("outer", 0.25, 30.0)

casing, loss = tepor.mean_on("outer"), tepor.heat_out_through("outer")
sized = wall.size_for(thickness, casing, 50.0, kind="at most", between=(0.01, 0.6))
wall.set(thickness, sized.value)
field = wall.steady()
print(f"insulation thickness  {1000 * sized.value:8.1f} mm   ({sized.solves} solves)")
print(f"casing                {field[casing]:8.2f} degC")
print(f"loss                  {field[loss]:8.1f} W/m2")
print(field.balance())
print(tepor.CAUTION_TOUCH)
