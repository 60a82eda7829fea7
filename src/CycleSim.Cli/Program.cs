using System.CommandLine;
using CycleSim.Cli;
using CycleSim.Definitions;
using CycleSim.Engine;
using CycleSim.Matching;
using CycleSim.Reports;
using CycleSim.Studies;

Console.OutputEncoding = new System.Text.UTF8Encoding(false);
var root = new RootCommand(
    """
    Turbofan performance from a definition file: operating points, flat ratings, influence coefficients, surge margins,
    sweeps.

    Examples:
      cyclesim engines
      cyclesim point velda-27 --design
      cyclesim point velda-27 --altitude "35000 ft" --mach 0.78 --isa "10 K" --rating max-climb
      cyclesim flat-rating velda-27 --altitude "6000 ft" --units us
      cyclesim rating-map velda-27
      cyclesim required-rating velda-27 --altitude "6000 ft" --temperature "38 °C" --thrust "95 kN"
      cyclesim influence velda-27 --altitude "35000 ft" --mach 0.78 --thrust "22 kN"
      cyclesim surge-margin velda-27
      cyclesim manoeuvre velda-27 --waypoint "altitude=0 ft, mach=0.2, lever=5 %" --waypoint "altitude=0 ft, mach=0.2, lever=95 %" --fuel-step "15 %"
      cyclesim penalties velda-27 --altitude "0 m" --isa "15 K" --load "packs: customer-bleed=1.2 kg/s"
      cyclesim power-setting velda-27 --temperatures C
      cyclesim sweep velda-27 --over "altitude=0 ft..40000 ft by 5000 ft" --over mach=0.5,0.78 --rating max-climb
      cyclesim throttle velda-27 --altitude "35000 ft" --mach 0.78 --rating max-cruise
      cyclesim tables velda-27 --rating max-climb --csv climb.csv
      cyclesim reduced-thrust velda-27 --altitude "0 ft" --temperature "20 °C" --wanted-thrust "100 kN"
      cyclesim egt-margin velda-27 --egt-limit "1260 K" --worn "hpt efficiency=-2 %"
      cyclesim diagnose velda-27 --altitude "0 ft" --mach 0 --N1 "95 %" --shift "EGT=12 K" --shift "fuel-flow=1.1 %"
      cyclesim uncertainty velda-27 --altitude "0 ft" --mach 0 --thrust "110 kN" --on "hpt efficiency: normal 0.5 %"
      cyclesim report velda-27
      cyclesim point my-engine.toml --altitude "0 m" --mach 0 --thrust "100 kN" --json

    Exit codes: 0 done, 2 command line not understood, 3 definition file refused, 4 no solution, 130 stopped, 1 anything else.
    Engineering study; not for dispatch, flight or maintenance.
    """
)
{
    EnginesCommand.Create(),
    PointCommand.Create(),
    FlatRatingCommand.Create(),
    RatingMapCommand.Create(),
    RequiredRatingCommand.Create(),
    InfluenceCommand.Create(),
    SurgeMarginCommand.Create(),
    ManoeuvreCommand.Create(),
    PenaltiesCommand.Create(),
    PowerTablesCommand.Create(),
    SweepCommand.Create(),
    JoinCommand.Create(),
    ThrottleCommand.Create(),
    TablesCommand.Create(),
    ReducedThrustCommand.Create(),
    EgtMarginCommand.Create(),
    DiagnoseCommand.Create(),
    UncertaintyCommand.Create(),
    ReportCommand.Create(),
};

var parsed = root.Parse(args);
if (parsed.Errors.Count > 0)
{
    foreach (var error in parsed.Errors)
        Console.Error.WriteLine(error.Message);
    Console.Error.WriteLine("'cyclesim --help' and 'cyclesim COMMAND --help' show what is understood.");
    return ExitCode.Usage;
}

try
{
    return parsed.Invoke(new InvocationConfiguration { EnableDefaultExceptionHandler = false });
}
catch (Exception error) when (error is UsageException or QuestionException)
{
    return Fail(error, ExitCode.Usage);
}
catch (DefinitionException error)
{
    return Fail(error, ExitCode.Definition);
}
catch (Exception error) when (error is SizingException or RatingException)
{
    return Fail(error, ExitCode.Definition);
}
catch (NoSolutionException error)
{
    return Fail(error, ExitCode.NoSolution);
}
catch (OperationCanceledException)
{
    Console.Error.WriteLine("Stopped; nothing was written.");
    return ExitCode.Stopped;
}

static int Fail(Exception error, int code)
{
    Console.Error.WriteLine(error.Message);
    return code;
}
