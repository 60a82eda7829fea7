#!/usr/bin/env dotnet
// Take-off thrust of velda-27 at an invented hot and high airport: where the flat rating breaks, and what 10 K more T41 buy.
// The study of ../hot-and-high-take-off.ipynb without a notebook: dotnet run hot-and-high-take-off.cs
#:project ../../src/CycleSim.Definitions/CycleSim.Definitions.csproj
#:project ../../src/CycleSim.Studies/CycleSim.Studies.fsproj

using CycleSim.Air;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Matching;
using CycleSim.Reports;
using CycleSim.Studies;

const double Elevation = 6200 * 0.3048; // m
const double Summer = 31 + 273.15; // K

var engine = EngineLibrary.Load("velda-27").Engine;
var asRated = new EngineModel(engine);
var takeOff = asRated.Rating("take-off");
var limit = takeOff.ImpliedLimit!.Value;
var raised = new EngineModel(
    engine with
    {
        Ratings =
        [
            new RatingDefinition
            {
                Name = "take-off",
                Thrust = takeOff.FlatThrust(0.0, 0.0),
                Limits = [.. takeOff.Definition.Limits, limit with { Value = limit.Value + 10.0 }],
            },
        ],
    }
);

Print("as rated", asRated, limit.Value);
Print("10 K more", raised, limit.Value + 10.0);
Console.WriteLine("Engineering study; not for dispatch, flight or maintenance.");

static void Print(string name, EngineModel model, double limit)
{
    var flat = FlatRating.Run(model, "take-off", Elevation, 0.0, [Summer]);
    var thrust = flat.Rows[0].Point!.NetThrust;
    Console.WriteLine(
        FormattableString.Invariant(
            $"{name, -10} T41 limit {limit:F1} K: {flat.FlatThrust / 1e3:F2} kN up to {flat.BreakTemperature - 273.15:F2} °C; {thrust / 1e3:F2} kN at {Summer - 273.15:F0} °C"
        )
    );
}
