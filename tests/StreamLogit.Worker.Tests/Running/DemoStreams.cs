namespace StreamLogit.Worker.Tests.Running;

/// <summary>The folder of demo streams in the source tree.</summary>
internal static class DemoStreams
{
    public static string Folder { get; } = RepositoryFiles.At("demo-streams");

    public static string File(string name) => Path.Combine(Folder, name);
}
