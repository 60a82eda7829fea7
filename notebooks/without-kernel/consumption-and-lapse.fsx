// Consumption over altitude and thrust lapse of lunde-14g: part of ../consumption-and-lapse.ipynb without a notebook.
// First: dotnet build -c Release ../../src/CycleSim.Notebooks; then: dotnet fsi consumption-and-lapse.fsx
#r "../../src/CycleSim.Notebooks/bin/Release/net10.0/CycleSim.Core.dll"
#r "../../src/CycleSim.Notebooks/bin/Release/net10.0/CycleSim.Definitions.dll"
#r "../../src/CycleSim.Notebooks/bin/Release/net10.0/CycleSim.Studies.dll"

open CycleSim.Air
open CycleSim.Definitions
open CycleSim.Reports
open CycleSim.Studies
open FSharp.Data.UnitSystems.SI.UnitSymbols

let model = EngineModel (EngineLibrary.Load "lunde-14g").Engine

let level hundreds =
    Units.feetToMetres (hundreds * 100.0<ft>)

for flightLevel in [ 310.0; 350.0; 390.0 ] do
    let flight = FlightCondition.AtIsaOffset(float (level flightLevel), 0.76, 0.0)
    let loop = Throttle.Loop(model, flight, "max-climb")
    let least = loop.Least.Point

    printfn
        "FL%.0f, Mach 0.76: rated %.2f kN; least SFC %.3f g/(kN s) at %.2f kN"
        flightLevel
        (float loop.RatedThrust / 1e3)
        (least.Sfc * 1e6)
        (least.NetThrust / 1e3)

let best =
    Throttle.AltitudeForThrust(model, 0.76, 0.0<K>, 18.0e3<N>, level 200.0, level 430.0)

printfn
    "18 kN at Mach 0.76 cost least at %.0f ft: %.3f g/(kN s)"
    (float (Units.metresToFeet (best.Least.Point.Flight.PressureAltitude * 1.0<m>)))
    (best.Least.Point.Sfc * 1e6)

printfn "Engineering study; not for dispatch, flight or maintenance."
