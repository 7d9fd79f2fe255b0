namespace StreamLogit.Worker.Tests.Running;

/// <summary>A folder that is gone after the test.</summary>
internal sealed class TemporaryFolder : IDisposable
{
    public string Root { get; } = Directory.CreateTempSubdirectory("streamlogit-").FullName;

    public string this[string name] => Path.Combine(Root, name);

    public string Write(string name, string text)
    {
        File.WriteAllText(this[name], text);
        return this[name];
    }

    public void Dispose() => Directory.Delete(Root, recursive: true);
}
