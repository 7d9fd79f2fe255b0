using System.Security.Cryptography;

namespace StreamLogit.Pipeline.Replay.Backtest;

/// <summary>Which recording was replayed.</summary>
/// <param name="Path">Its name.</param>
/// <param name="Bytes">Its length, or null of a pipe.</param>
/// <param name="Sha256">The SHA-256 of its bytes as they lie on the disk, in lower-case hexadecimal; null of a pipe, or where the replay was stopped.</param>
public sealed record RecordingIdentity(string Path, long? Bytes, string? Sha256)
{
    internal static async Task<RecordingIdentity> OfAsync(string path, CancellationToken stop)
    {
        // A pipe has no length, and what is read of it here would be missing in the replay.
        if (new FileInfo(path) is not { Exists: true, Length: > 0 }) return new RecordingIdentity(path, null, null);
        try
        {
            using var file = new FileStream(path, FileMode.Open, FileAccess.Read, FileShare.ReadWrite | FileShare.Delete, 1 << 20, FileOptions.SequentialScan);
            byte[] hash = await SHA256.HashDataAsync(file, stop).ConfigureAwait(false);
            return new RecordingIdentity(path, file.Length, Convert.ToHexStringLower(hash));
        }
        catch (OperationCanceledException)
        {
            return new RecordingIdentity(path, null, null);
        }
        catch (IOException e)
        {
            throw new PipelineException($"The recording {path} cannot be read: {e.Message}", e);
        }
    }
}
