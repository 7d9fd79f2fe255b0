namespace StreamLogit.Pipeline.State;

/// <summary>Keeps a state folder for one process. The operating system lets go of it when the process ends, however it ends.</summary>
internal sealed class StateLock : IDisposable
{
    private readonly FileStream _file;

    private StateLock(FileStream file) => _file = file;

    /// <summary>Takes the folder.</summary>
    /// <exception cref="PipelineException">Another process has it.</exception>
    public static StateLock Take(string folder)
    {
        string path = Path.Combine(folder, "lock");
        try
        {
            return new StateLock(new FileStream(path, FileMode.OpenOrCreate, FileAccess.ReadWrite, FileShare.None, bufferSize: 0));
        }
        catch (UnauthorizedAccessException e)
        {
            throw StorageFault.OfFile(path, e);
        }
        catch (IOException e)
        {
            throw StorageFault.IsFull(e)
                ? StorageFault.OfFile(path, e)
                : new PipelineException($"The state folder {folder} is in use by another worker. One state serves one worker at a time.", e);
        }
    }

    // The file stays: were it deleted, two processes could each hold a lock on a file of that name.
    public void Dispose() => _file.Dispose();
}
