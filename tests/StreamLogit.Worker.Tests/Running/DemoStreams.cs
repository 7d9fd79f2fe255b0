using System.Runtime.CompilerServices;

namespace StreamLogit.Worker.Tests.Running;

/// <summary>The folder of demo streams in the source tree.</summary>
internal static class DemoStreams
{
    public static string Folder { get; } = Path.GetFullPath(Path.Combine(Path.GetDirectoryName(ThisFile())!, "..", "..", "..", "demo-streams"));

    public static string File(string name) => Path.Combine(Folder, name);

    private static string ThisFile([CallerFilePath] string path = "") => path;
}
