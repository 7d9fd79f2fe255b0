using System.IO.Pipes;
using System.Text;
using StreamLogit.Pipeline.Files;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Tests.Files;

public sealed class PipeTests : IDisposable
{
    private readonly AnonymousPipeServerStream _writing = new(PipeDirection.Out);
    private readonly FileSource _source;

    public PipeTests()
    {
        var reading = new AnonymousPipeClientStream(PipeDirection.In, _writing.ClientSafePipeHandle);
        _source = FileSource.Open(
            RecordingFile.OfPipe("stdin", reading), new FileSourceOptions("-", RecordingFormat.JsonLines), 1000, new JumpingTime());
    }

    public void Dispose()
    {
        _writing.Dispose();
        _source.Dispose();
    }

    private void Send(string text)
    {
        _writing.Write(Encoding.UTF8.GetBytes(text));
        _writing.Flush();
    }

    [Fact]
    public async Task Fill_LinesInPieces_GivesThemAndEndsWithThePipe()
    {
        var batch = Schemas.NewBatch();
        var taken = new List<TakenRecord>();
        string[] pieces = ["{\"a\":1}\n{\"a\"", ":2}\n", "{\"a\":3}"];
        foreach (string piece in pieces)
        {
            Assert.Equal(FillOutcome.Idle, await _source.FillAsync(batch, 10, CancellationToken.None));
            Send(piece);
            // The third piece gives no record yet: its line may go on.
            while (taken.Count < 2 && await _source.FillAsync(batch, 10, CancellationToken.None) == FillOutcome.Idle) { }
            taken.AddRange(TakenRecord.Of(batch));
            batch.Clear();
        }
        _writing.Dispose();
        while (await _source.FillAsync(batch, 10, CancellationToken.None) == FillOutcome.Idle) { }
        taken.AddRange(TakenRecord.Of(batch));

        Assert.Equal([new TakenRecord("{\"a\":1}", 1), new TakenRecord("{\"a\":2}", 2), new TakenRecord("{\"a\":3}", 3)], taken);
        batch.Clear();
        Assert.Equal(FillOutcome.Ended, await _source.FillAsync(batch, 10, CancellationToken.None));
    }

    [Fact]
    public async Task Position_OfAPipe_IsNone()
    {
        Send("{\"a\":1}\n");
        var batch = Schemas.NewBatch();
        while (await _source.FillAsync(batch, 10, CancellationToken.None) == FillOutcome.Idle) { }

        Assert.Empty(_source.Position.Origins);
        Assert.Equal(new SourceProgress(8, null), _source.Progress);
        Assert.Equal("stdin", batch.Origin);
    }
}
