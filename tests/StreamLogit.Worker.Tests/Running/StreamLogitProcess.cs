using System.Collections.Concurrent;
using System.Diagnostics;
using System.Globalization;

namespace StreamLogit.Worker.Tests.Running;

/// <summary>The built program, as a process of its own.</summary>
internal sealed class StreamLogitProcess : IDisposable
{
    public static readonly string Program = Path.Combine(AppContext.BaseDirectory, "streamlogit.dll");
    /// <summary>How long a test waits for the program before it fails.</summary>
    public static readonly TimeSpan Patience = TimeSpan.FromMinutes(3);

    private readonly Process _process;
    private readonly Task<byte[]> _output;
    private readonly Task _errors;
    private readonly BlockingCollection<string> _errorLines = [];
    private readonly List<string> _errorLinesSeen = [];

    private StreamLogitProcess(Process process, byte[] input)
    {
        _process = process;
        _output = ReadAsync(process.StandardOutput.BaseStream);
        _errors = Task.Run(() =>
        {
            while (process.StandardError.ReadLine() is { } line) _errorLines.Add(line);
            _errorLines.CompleteAdding();
        });
        process.StandardInput.BaseStream.Write(input);
        process.StandardInput.Close();
    }

    public bool HasExited => _process.HasExited;

    public static StreamLogitProcess Start(params string[] arguments) => Start("dotnet", [Program, .. arguments], [], []);

    public static StreamLogitProcess Start(string file, string[] arguments, (string Name, string Value)[] environment, byte[] input)
    {
        var info = new ProcessStartInfo(file, arguments)
        {
            RedirectStandardInput = true,
            RedirectStandardOutput = true,
            RedirectStandardError = true,
        };
        foreach (var (name, value) in environment) info.Environment[name] = value;
        return new StreamLogitProcess(Process.Start(info)!, input);
    }

    /// <summary>Runs the program to its end.</summary>
    public static ProgramResult Run(params string[] arguments) => RunWith([], arguments);

    /// <summary>Runs the program to its end with environment variables.</summary>
    public static ProgramResult RunWith((string Name, string Value)[] environment, params string[] arguments)
    {
        using var process = Start("dotnet", [Program, .. arguments], environment, []);
        return process.WaitForEnd();
    }

    /// <summary>Runs the program to its end with these bytes as its standard input.</summary>
    public static ProgramResult RunOn(byte[] input, params string[] arguments)
    {
        using var process = Start("dotnet", [Program, .. arguments], [], input);
        return process.WaitForEnd();
    }

    public ProgramResult WaitForEnd()
    {
        if (!_process.WaitForExit(Patience))
        {
            _process.Kill();
            throw new TimeoutException("The program did not end. It said: " + string.Join('\n', _errorLines));
        }
        if (!Task.WaitAll([_errors, _output], Patience)) throw new TimeoutException("The program ended, but something holds its output open.");
        _errorLinesSeen.AddRange(_errorLines);
        return new ProgramResult(_process.ExitCode, _output.Result, string.Concat(_errorLinesSeen.Select(line => line + "\n")));
    }

    /// <summary>Waits until the program says something on standard error, and gives the whole line.</summary>
    public string WaitForMessage(string part)
    {
        foreach (string line in _errorLines.GetConsumingEnumerable(new CancellationTokenSource(Patience).Token))
        {
            _errorLinesSeen.Add(line);
            if (line.Contains(part, StringComparison.Ordinal)) return line;
        }
        throw new InvalidOperationException($"The program ended without saying '{part}': " + string.Join('\n', _errorLinesSeen));
    }

    /// <summary>Waits until a file has so many bytes, or the program has ended.</summary>
    public void WaitForLength(string path, long bytes)
    {
        if (!SpinWait.SpinUntil(() => HasExited || (File.Exists(path) && new FileInfo(path).Length >= bytes), Patience))
            throw new TimeoutException($"'{path}' did not grow to {bytes} bytes. The program said: " + string.Join('\n', _errorLines));
    }

    /// <summary>Ends the process without giving it a chance to do anything: SIGKILL.</summary>
    public void Kill() => _process.Kill();

    /// <summary>Asks the process to end: SIGTERM.</summary>
    public void Terminate()
    {
        using var kill = Process.Start("kill", ["-TERM", _process.Id.ToString(CultureInfo.InvariantCulture)]);
        kill.WaitForExit(Patience);
    }

    public void Dispose()
    {
        if (!_process.HasExited)
        {
            _process.Kill();
            _process.WaitForExit();
        }
        _process.Dispose();
        _errorLines.Dispose();
    }

    private static async Task<byte[]> ReadAsync(Stream stream)
    {
        using var bytes = new MemoryStream();
        await stream.CopyToAsync(bytes);
        return bytes.ToArray();
    }
}
