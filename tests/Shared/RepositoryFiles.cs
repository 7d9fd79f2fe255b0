namespace StreamLogit.Tests;

/// <summary>Finds files of the repository from the folder of the test program upwards: a source path that a compiler recorded may be mapped to none.</summary>
internal static class RepositoryFiles
{
    /// <summary>The folder of the repository.</summary>
    public static string Root { get; } = FindRoot();

    /// <summary>The path of a file, from its path within the repository.</summary>
    public static string At(params ReadOnlySpan<string> parts) => Path.Combine([Root, .. parts]);

    /// <summary>The text of a file, from its path within the repository.</summary>
    public static string Read(string path) => File.ReadAllText(At(path));

    private static string FindRoot()
    {
        for (string? folder = AppContext.BaseDirectory; folder is not null; folder = Path.GetDirectoryName(folder))
        {
            if (File.Exists(Path.Combine(folder, "StreamLogit.sln"))) return folder;
        }
        throw new DirectoryNotFoundException("The folder of StreamLogit.sln is not above the tests.");
    }
}
