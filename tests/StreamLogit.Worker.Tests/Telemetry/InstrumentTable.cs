namespace StreamLogit.Worker.Tests.Telemetry;

/// <summary>The tables of instruments in docs/telemetry.md.</summary>
internal static class InstrumentTable
{
    public static IReadOnlyList<(string Name, string Kind, string Unit, string[] Attributes, string Meaning)> Rows { get; } =
    [
        .. RepositoryFiles.Read("docs/telemetry.md").Split('\n')
            .Where(line => line.StartsWith("| `messaging.", StringComparison.Ordinal) || line.StartsWith("| `streamlogit.", StringComparison.Ordinal))
            .Select(line => line.Split('|').Select(cell => cell.Trim().Replace("`", "", StringComparison.Ordinal)).ToArray())
            .Select(cells => (cells[1], cells[2], cells[3], cells[4].Split(", ", StringSplitOptions.RemoveEmptyEntries), cells[5])),
    ];
}
