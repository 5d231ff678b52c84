return Qc.Verify.CommandLine.Run(args, Console.Out, Console.Error);
