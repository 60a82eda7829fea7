namespace CycleSim.Cli;

/// <summary>What the program's exit status means.</summary>
internal static class ExitCode
{
    public const int Done = 0;
    public const int Usage = 2;
    public const int Definition = 3;
    public const int NoSolution = 4;

    /// <summary>Ended by Ctrl-C, as a shell reports it.</summary>
    public const int Stopped = 130;
}

/// <summary>A command line that cannot be understood.</summary>
internal sealed class UsageException(string message) : Exception(message);
