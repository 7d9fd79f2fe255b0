using System.Globalization;
using System.Text.Json;

namespace StreamLogit.Engine.Tests;

/// <summary>The files of tests/data. See SOURCES.md there.</summary>
internal static class TestData
{
    public static string Folder { get; } = RepositoryFiles.At("tests", "data");

    /// <summary>The values in reference.json.</summary>
    public static JsonElement Reference { get; } = JsonDocument.Parse(File.ReadAllText(Path.Combine(Folder, "reference.json"))).RootElement;

    /// <summary>The rows of a CSV file without quotes inside of fields, as the named columns.</summary>
    public static List<double[]> Columns(string file, params string[] names)
    {
        string[] lines = File.ReadAllLines(Path.Combine(Folder, file));
        string[] header = lines[0].Replace("\"", "", StringComparison.Ordinal).Split(',');
        int[] places = [.. names.Select(name => Array.IndexOf(header, name))];
        if (places.Contains(-1)) throw new InvalidDataException($"A column is missing in {file}.");
        return [.. lines.Skip(1).Where(line => line.Length > 0).Select(line =>
        {
            string[] fields = line.Split(',');
            return places.Select(place => double.Parse(fields[place], CultureInfo.InvariantCulture)).ToArray();
        })];
    }
}
