namespace CycleSim.Maps;

/// <summary>A compressor map with the position of the design point on it.</summary>
/// <param name="Map">the map, scaled to the design point at sizing</param>
/// <param name="DesignBeta">position of the design point on the line of speed 1</param>
/// <param name="LowestFoundedSpeed">lowest relative corrected speed for which there is data behind the map</param>
public sealed record PlacedMap(CompressorMap Map, double DesignBeta, double LowestFoundedSpeed);
