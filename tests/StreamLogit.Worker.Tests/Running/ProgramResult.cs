using System.Text;
using System.Text.Json;

namespace StreamLogit.Worker.Tests.Running;

/// <summary>What a run of the program left behind.</summary>
internal sealed record ProgramResult(int ExitCode, byte[] OutputBytes, string Errors)
{
    public string Output => Encoding.UTF8.GetString(OutputBytes);

    public JsonElement Json => JsonSerializer.Deserialize<JsonElement>(OutputBytes);

    /// <summary>The rows of a tab-separated table on standard output that begins with a column of this name.</summary>
    public List<string[]> Table(string firstColumn) =>
    [
        .. Output.Split('\n').SkipWhile(line => !line.StartsWith(firstColumn + "\t", StringComparison.Ordinal))
            .TakeWhile(line => line.Length > 0).Select(line => line.Split('\t')),
    ];
}
