"""How long must a furnace lining be heated before its cold side reaches 60 degC, and what does it cost? An invented plant."""
import tepor

lining = tepor.Body(tepor.layers([("brick", 0.230, 12), ("fibre", 0.060, 6), ("casing", 0.006, 1)]))
lining.material("brick", tepor.table([(20, 1.10), (600, 1.25), (1300, 1.50)]), density=2100.0, specific_heat=960.0)
lining.material("fibre", 0.16, density=200.0, specific_heat=1050.0)
lining.material("casing", 48.0, density=7850.0, specific_heat=470.0)
lining.film("inner", 60.0, tepor.schedule([(0, 25), (4 * 3600, 1100)], ramps=True))  # degC of the gas: a ramp, then steady
lining.film("outer", 8.0, 25.0)
lining.radiation("outer", 0.85, 25.0)

shell, hot = tepor.mean_on("outer"), tepor.mean_on("inner")
march = lining.march(25.0, step=60.0)
reached = march.time_to_reach(shell, 60.0, latest=48 * 3600.0)
print(f"casing at 60 degC after {reached / 3600:7.2f} h")
print(f"hot face then           {march[hot]:7.1f} degC")
print(f"mean of the last step: {march.balance()}")
march.advance_to(96 * 3600.0)
print(f"casing after four days  {march[shell]:7.1f} degC, loss {march[tepor.heat_out_through('outer')]:.0f} W/m2")
print(tepor.CAUTION_TOUCH)
