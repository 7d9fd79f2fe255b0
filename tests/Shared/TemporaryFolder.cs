namespace StreamLogit.Tests;

/// <summary>A folder that is gone when the test is over.</summary>
internal sealed class TemporaryFolder : IDisposable
{
    private const string Memory = "/dev/shm";

    /// <summary>A new folder.</summary>
    /// <param name="inMemory">Whether it may lie in memory, where no write waits for a disk. For tests with very many small states.</param>
    public TemporaryFolder(bool inMemory = false) => Path = inMemory && Directory.Exists(Memory)
        ? Directory.CreateDirectory(System.IO.Path.Combine(Memory, $"streamlogit-{Guid.NewGuid():N}")).FullName
        : Directory.CreateTempSubdirectory("streamlogit-").FullName;

    public string Path { get; }

    public string this[string name] => System.IO.Path.Combine(Path, name);

    public string Write(string name, string text)
    {
        File.WriteAllText(this[name], text);
        return this[name];
    }

    public string Write(string name, byte[] bytes)
    {
        File.WriteAllBytes(this[name], bytes);
        return this[name];
    }

    public void Dispose() => Directory.Delete(Path, recursive: true);
}
