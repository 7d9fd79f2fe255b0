using System.Buffers;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Options;
using ZstdSharp;

namespace StreamLogit.Pipeline.Files;

/// <summary>
/// Records every record in the order in which the engine takes it, rejects included, as JSON Lines packed with Zstandard. A new file begins with every
/// day of the stream's time and when one is full. Its mark is the number of bytes of all files together.
/// </summary>
/// <remarks>
/// Every commit ends a Zstandard frame, so that all files together can be cut back to it. A line end within a record, which JSON knows only between
/// values, becomes a space. Of a record that is too long the first bytes are recorded, which make a reject too.
/// </remarks>
public sealed class RecordingFolder(RecordingOptions options) : IScoreSink
{
    private const int CompressionLevel = 3;
    private const int FullBytes = 1 << 17;
    private const long MicrosecondsPerDay = 24L * 3600 * 1_000_000;

    private readonly ArrayBufferWriter<byte> _lines = new(FullBytes + (1 << 12));
    private FileStream? _file;
    private CompressionStream? _frame;
    private long _start; // bytes of all files before the one at hand
    private long _day = RecordingFileName.Undated; // of the file at hand
    private long _clock = long.MinValue;
    private bool _isStarted;

    /// <inheritdoc/>
    public string Name => "recording";

    /// <inheritdoc/>
    public void Start(long? mark) => Try(options.Folder, () =>
    {
        Dispose();
        (_file, _frame, _start, _day, _clock) = (null, null, 0, RecordingFileName.Undated, long.MinValue);
        _lines.ResetWrittenCount();
        Directory.CreateDirectory(options.Folder);
        var names = Directory.EnumerateFiles(options.Folder).Select(RecordingFileName.Parse).OfType<RecordingFileName>().OrderBy(name => name.Start).ToList();
        if (mark is null && names.Count > 0)
            throw new PipelineException(
                $"{options.Folder} already holds recordings that the state knows nothing of. Move them away, or put back the state folder that belongs to them.");
        foreach (var name in names.Where(name => name.Start >= mark)) File.Delete(PathOf(name));
        if (mark > 0) TakeUp(names.LastOrDefault(name => name.Start < mark), mark.Value);
        _isStarted = true;
    });

    /// <inheritdoc/>
    public void Write(RecordBatch records, ScoreBatch scores)
    {
        if (!_isStarted) throw new InvalidOperationException("The recording was not started.");
        for (int i = 0; i < records.Count; i++)
        {
            ref readonly var record = ref records.Record(i);
            if (record.Kind != RecordKind.Reject) _clock = Math.Max(_clock, record.TimeMicroseconds);
            long day = _clock == long.MinValue ? RecordingFileName.Undated : Math.Max(0, _clock / MicrosecondsPerDay);
            if (_file is null || day > _day) Begin(day);
            Add(records.RecordBytes(i));
            if (_lines.WrittenCount >= FullBytes) Send();
        }
        Send();
    }

    /// <inheritdoc/>
    public long Flush()
    {
        if (_file is null) return _start;
        Send();
        EndFrame();
        Try(_file.Name, () => _file.Flush(flushToDisk: true));
        long end = _start + _file.Position;
        if (_file.Position >= options.MaximumBytes) Close();
        return end;
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        try
        {
            _frame?.Dispose();
        }
        catch (IOException)
        {
            // What was not committed is cut away when the recording is taken up again.
        }
        _file?.Dispose();
    }

    private string PathOf(RecordingFileName name) => Path.Combine(options.Folder, name.ToString());

    private void TakeUp(RecordingFileName? name, long mark)
    {
        string path = name is null ? options.Folder : PathOf(name);
        long held = name is null ? 0 : name.Start + new FileInfo(path).Length;
        if (name is null || held < mark)
            throw new PipelineException(
                $"{path} ends at byte {held} of the recording, but {mark} were committed: it was moved, cut or replaced. "
                + "Put it back, or begin with a new state folder. Only files before the last may be moved away.");
        _file = new FileStream(path, FileMode.Open, FileAccess.Write, FileShare.Read | FileShare.Delete, bufferSize: 0);
        _file.SetLength(mark - name.Start);
        _file.Position = mark - name.Start;
        (_start, _day) = (name.Start, name.Day);
        if (_file.Position >= options.MaximumBytes) Close();
    }

    private void Begin(long day)
    {
        if (_file is not null)
        {
            Send();
            EndFrame();
            Try(_file.Name, () => _file.Flush(flushToDisk: true));
            Close();
        }
        _day = day;
        string path = PathOf(new RecordingFileName(_start, day));
        Try(path, () => _file = new FileStream(path, FileMode.CreateNew, FileAccess.Write, FileShare.Read | FileShare.Delete, bufferSize: 0));
    }

    private void Close()
    {
        _start += _file!.Position;
        _file.Dispose();
        _file = null;
    }

    private void Add(ReadOnlySpan<byte> record)
    {
        var line = _lines.GetSpan(record.Length + 1)[..(record.Length + 1)];
        record.CopyTo(line);
        line[..^1].Replace((byte)'\n', (byte)' ');
        line[^1] = (byte)'\n';
        _lines.Advance(line.Length);
    }

    private void Send()
    {
        if (_lines.WrittenCount == 0) return;
        _frame ??= new CompressionStream(_file!, CompressionLevel, leaveOpen: true);
        Try(_file!.Name, () => _frame.Write(_lines.WrittenSpan));
        _lines.ResetWrittenCount();
    }

    private void EndFrame()
    {
        if (_frame is null) return;
        Try(_file!.Name, _frame.Dispose);
        _frame = null;
    }

    private static void Try(string path, Action action)
    {
        try
        {
            action();
        }
        // A file that grows beyond what its file system, or a limit of the process, allows is said to be an argument out of range.
        catch (Exception e) when (e is IOException or UnauthorizedAccessException or ArgumentOutOfRangeException)
        {
            throw StorageFault.OfFile(path, e);
        }
    }
}
