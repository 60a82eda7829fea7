using CycleSim.Maps;

namespace CycleSim.Definitions;

/// <summary>Reads a compressor's map from a file beside the definition; the rules are those of <see cref="CompressorMapTable"/>.</summary>
internal static class MapFile
{
    /// <summary>The map, or null with the problems added.</summary>
    public static PlacedMap? Read(string path, List<Problem> problems)
    {
        try
        {
            return CompressorMapTable.Read(File.ReadAllText(path), path);
        }
        catch (MapTableException error)
        {
            problems.AddRange(
                error.Problems.Select(p => new Problem(path, p.Line, Math.Min(p.Line, 1), "", p.Message))
            );
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException)
        {
            problems.Add(new Problem(path, 0, 0, "", $"cannot be read: {error.Message}"));
        }

        return null;
    }
}
