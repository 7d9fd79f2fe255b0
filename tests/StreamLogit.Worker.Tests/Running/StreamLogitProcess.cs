using System.Diagnostics;

namespace StreamLogit.Worker.Tests.Running;

/// <summary>The built program, as a process of its own.</summary>
internal sealed class StreamLogitProcess : IDisposable
{
    private static readonly TimeSpan Patience = TimeSpan.FromSeconds(60);
    private static readonly string Program = Path.Combine(AppContext.BaseDirectory, "streamlogit.dll");

    private readonly Process _process;
    private readonly Task<byte[]> _output;
    private readonly Task<string> _errors;

    private StreamLogitProcess(Process process)
    {
        _process = process;
        _output = ReadAsync(process.StandardOutput.BaseStream);
        _errors = process.StandardError.ReadToEndAsync();
    }

    public int Id => _process.Id;

    public bool HasExited => _process.HasExited;

    public static StreamLogitProcess Start(string[] arguments, params (string Name, string Value)[] environment)
    {
        var info = new ProcessStartInfo("dotnet", [Program, .. arguments])
        {
            RedirectStandardInput = true,
            RedirectStandardOutput = true,
            RedirectStandardError = true,
        };
        foreach (var (name, value) in environment) info.Environment[name] = value;
        var process = Process.Start(info)!;
        process.StandardInput.Close();
        return new StreamLogitProcess(process);
    }

    /// <summary>Runs the program to its end.</summary>
    public static ProgramResult Run(params string[] arguments) => RunWith([], arguments);

    /// <summary>Runs the program to its end with environment variables.</summary>
    public static ProgramResult RunWith((string Name, string Value)[] environment, params string[] arguments)
    {
        using var process = Start(arguments, environment);
        return process.WaitForEnd();
    }

    public ProgramResult WaitForEnd()
    {
        if (!_process.WaitForExit(Patience))
        {
            _process.Kill();
            throw new TimeoutException("The program did not end. It said: " + _errors.Result);
        }
        return new ProgramResult(_process.ExitCode, _output.Result, _errors.Result);
    }

    /// <summary>Ends the process without giving it a chance to do anything: SIGKILL.</summary>
    public void Kill() => _process.Kill();

    /// <summary>Asks the process to end: SIGTERM.</summary>
    public void Terminate()
    {
        using var kill = Process.Start("kill", ["-TERM", _process.Id.ToString(System.Globalization.CultureInfo.InvariantCulture)]);
        kill.WaitForExit();
    }

    public void Dispose()
    {
        if (!_process.HasExited) _process.Kill();
        _process.Dispose();
    }

    private static async Task<byte[]> ReadAsync(Stream stream)
    {
        using var bytes = new MemoryStream();
        await stream.CopyToAsync(bytes);
        return bytes.ToArray();
    }
}
