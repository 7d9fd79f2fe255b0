using System.Runtime.CompilerServices;

namespace StreamLogit.Pipeline.Tests.Definition;

/// <summary>Finds files of the repository that tests keep true.</summary>
internal static class RepositoryFiles
{
    /// <summary>The folder of the repository.</summary>
    public static string Root { get; } = FindRoot();

    public static string Read(string path) => File.ReadAllText(Path.Combine(Root, path));

    private static string FindRoot([CallerFilePath] string thisFile = "")
    {
        // Deterministic builds map source paths, so the folder of the tests' binaries is the one to start from.
        foreach (string? start in new[] { AppContext.BaseDirectory, Path.GetDirectoryName(thisFile) })
        {
            for (string? folder = start; folder is not null; folder = Path.GetDirectoryName(folder))
            {
                if (File.Exists(Path.Combine(folder, "StreamLogit.sln"))) return folder;
            }
        }
        throw new DirectoryNotFoundException("The folder of StreamLogit.sln is not above the tests.");
    }
}
